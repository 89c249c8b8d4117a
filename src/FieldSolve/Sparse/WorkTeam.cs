namespace FieldSolve.Sparse;

/// <summary>
/// Threads that work off a list of jobs; jobs may add jobs, and may divide themselves into parts that idle threads take over. The calling thread is one of
/// the team, so everything gets done even when no other thread is free.
/// </summary>
internal sealed class WorkTeam
{
    private readonly LinkedList<Action> jobs = new();
    private int open;
    private Exception? failure;

    /// <summary>Runs jobs until none is left.</summary>
    /// <param name="degree">Threads, at least 1.</param>
    /// <param name="first">Jobs to begin with, in this sequence.</param>
    /// <exception cref="AggregateException">A job failed; its exception is inside.</exception>
    public void Run(int degree, IEnumerable<Action> first)
    {
        foreach (Action job in first)
        {
            Add(job);
        }
        Task[] others = new Task[degree - 1];
        for (int i = 0; i < others.Length; i++)
        {
            others[i] = Task.Run(Work);
        }
        Work();
        Task.WaitAll(others);
        if (failure is not null)
        {
            throw new AggregateException(failure);
        }
    }

    /// <summary>Adds a job that must be done.</summary>
    public void Add(Action job)
    {
        lock (jobs)
        {
            open++;
            jobs.AddLast(job);
            Monitor.Pulse(jobs);
        }
    }

    /// <summary>Runs a body for 0 .. parts - 1 with the help of idle threads; returns when all are done.</summary>
    public void Divide(int parts, Action<int> body)
    {
        int next = 0, done = 0;
        void Help()
        {
            for (int i = Interlocked.Increment(ref next) - 1; i < parts; i = Interlocked.Increment(ref next) - 1)
            {
                try
                {
                    body(i);
                }
                catch (Exception e) when (Fail(e))
                {
                }
                Interlocked.Increment(ref done);
            }
        }
        lock (jobs)
        {
            jobs.AddFirst(Help);
            Monitor.Pulse(jobs);
        }
        Help();
        var wait = default(SpinWait);
        while (Volatile.Read(ref done) < parts)
        {
            wait.SpinOnce(sleep1Threshold: -1);
        }
    }

    private bool Fail(Exception e)
    {
        lock (jobs)
        {
            failure ??= e;
            Monitor.PulseAll(jobs);
        }
        return true;
    }

    private void Work()
    {
        while (true)
        {
            Action job;
            lock (jobs)
            {
                while (jobs.Count == 0 && open > 0 && failure is null)
                {
                    Monitor.Wait(jobs);
                }
                if (jobs.Count == 0 || failure is not null)
                {
                    return;
                }
                job = jobs.First!.Value;
                jobs.RemoveFirst();
            }
            try
            {
                job();
            }
            catch (Exception e) when (Fail(e))
            {
            }
        }
    }

    /// <summary>Ends a job that was added.</summary>
    public void Done()
    {
        lock (jobs)
        {
            if (--open == 0)
            {
                Monitor.PulseAll(jobs);
            }
        }
    }
}
