namespace StreamLogit.Tests.Contracts;

/// <summary>Counts the steps of a run and dies at one of them.</summary>
internal sealed class Death(int step)
{
    private int _steps;

    public int Steps => _steps;

    public void Step()
    {
        if (Interlocked.Increment(ref _steps) == step) throw new DeathException();
    }
}
