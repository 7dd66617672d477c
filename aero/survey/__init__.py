"""The main job: one pass from a trajectory file to tables, figures and a report."""
