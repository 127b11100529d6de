"""Verdict over the tolerance corners: does the load stay inside the window?"""
