namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>The wealth of a bettor who starts with 1: a product of positive factors, kept in the range of a double, and its peak.</summary>
internal struct Wealth
{
    private const double Step = 1e100;
    private const double LogStep = 230.25850929940457;
    private const double Level = 20;

    // Wealth is Value * Step^Steps.
    private double _value;
    private double _peak;
    private int _steps;
    private int _peakSteps;
    private long _reachedAt;
    private bool _hasReached;

    public static Wealth One => new() { _value = 1, _peak = 1 };

    /// <summary>Wins or loses a bet.</summary>
    public void Multiply(double factor, long timeMicroseconds)
    {
        _value *= factor;
        if (_value > Step) (_value, _steps) = (_value / Step, _steps + 1);
        else if (_value < 1 / Step) (_value, _steps) = (_value * Step, _steps - 1);
        if (_steps < _peakSteps || (_steps == _peakSteps && _value <= _peak)) return;
        (_peak, _peakSteps) = (_value, _steps);
        if (_hasReached || (_steps == 0 && _value < Level) || _steps < 0) return;
        (_hasReached, _reachedAt) = (true, timeMicroseconds);
    }

    public readonly Evidence ToEvidence() => new(
        Math.Log(_value) + _steps * LogStep, Math.Log(_peak) + _peakSteps * LogStep, _hasReached ? _reachedAt : null);
}
