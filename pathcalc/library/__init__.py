"""Case libraries under version control: stored results, comparison, runs at scale.

``compare`` says what differs between two cases, ``verdict`` how one case stands, ``run`` solves a folder and holds it
against the stored results. Nothing here prints, and nothing writes unless it is asked to accept.
"""
