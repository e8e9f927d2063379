"""The reduction: timed drops and a bench sheet to run-set results; it joins, it has no formula."""
