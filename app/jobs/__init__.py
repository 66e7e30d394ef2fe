"""Long computations in processes of their own: progress, time limit, stop, result.

Called by ``web/``.  A task is a top-level function with JSON text in and JSON text out; this room knows which tasks
there are and how to run them, and refuses to know pages, desks and requests.

    tasks.py    the tasks
    pool.py     queue, processes, states
"""
