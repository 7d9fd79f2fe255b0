using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Fitting;

/// <summary>
/// The baseline that many teams run: a logistic regression refitted every midnight on the labels of the last days, which then scores the new day
/// unchanged. Each fit starts from the one before. Memory goes with the labels of the trailing days.
/// </summary>
public sealed class NightlyRefit
{
    private const long MicrosecondsPerDay = 86_400_000_000;
    private readonly NightlyRefitOptions _options;
    private readonly SparseColumns _columns = new();
    private readonly SortedDictionary<long, SparseRows> _days = [];
    private readonly SortedDictionary<long, SparseFit> _fits = [];
    private long _today = long.MinValue;

    /// <exception cref="ArgumentException">The options are out of their range.</exception>
    public NightlyRefit(NightlyRefitOptions options)
    {
        if (options.TrailingDays < 1) throw new ArgumentException("there must be at least one trailing day", nameof(options));
        if (options.KeptFits < 1) throw new ArgumentException("at least one fit must be kept", nameof(options));
        _options = options;
    }

    /// <summary>The fit that scores today, or null before the first midnight after a label.</summary>
    public SparseFit? Fit { get; private set; }

    /// <summary>Fits made.</summary>
    public int Fits { get; private set; }

    /// <summary>Passes over the rows that all fits took together.</summary>
    public long Passes { get; private set; }

    /// <summary>The calendar day (UTC) of a time: days since 1970-01-01.</summary>
    public static long DayOf(long timeMicroseconds)
    {
        long day = timeMicroseconds / MicrosecondsPerDay;
        return timeMicroseconds % MicrosecondsPerDay < 0 ? day - 1 : day;
    }

    /// <summary>
    /// Goes to a day, through every midnight on the way: forgets what is too old and fits the labels learned so far. Nothing happens where the day
    /// is not later.
    /// </summary>
    public void GoTo(long day)
    {
        if (day <= _today) return;

        // After a long silence only the last days have anything left to fit.
        long next = _today == long.MinValue ? day : Math.Max(_today + 1, day - _options.TrailingDays);
        for (; next <= day; next++) Refit(next);
        _today = day;
    }

    /// <summary>The log-odds of an event by the fit of its day, or NaN where that day had none or is no longer kept.</summary>
    /// <param name="x">The event.</param>
    /// <param name="day">The day on which it was scored, today or before.</param>
    public double LogOdds(in EncodedVector x, long day) => _fits.TryGetValue(day, out var fit) ? fit.LogOdds(in x) : double.NaN;

    /// <summary>Learns a label for the fits of later midnights.</summary>
    /// <param name="x">The event.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">0 or more.</param>
    /// <param name="day">The day of the event. One that is too old to come into any later fit is passed over.</param>
    public void Learn(in EncodedVector x, int label, double weight, long day)
    {
        if (_today != long.MinValue && day < _today + 1 - _options.TrailingDays) return;
        if (!_days.TryGetValue(day, out var rows)) _days.Add(day, rows = new SparseRows(_columns));
        rows.Add(in x, label, weight);
    }

    /// <summary>Takes back a label that was learned and turned out wrong, from the fits of later midnights.</summary>
    /// <param name="x">The event.</param>
    /// <param name="label">The wrong label.</param>
    /// <param name="weight">The weight with which it was learned.</param>
    /// <param name="day">The day of the event.</param>
    public void TakeBack(in EncodedVector x, int label, double weight, long day)
    {
        if (_days.TryGetValue(day, out var rows)) rows.TakeBack(in x, label, weight);
    }

    private void Refit(long day)
    {
        foreach (long old in _days.Keys.TakeWhile(d => d < day - _options.TrailingDays).ToList()) _days.Remove(old);
        foreach (long old in _fits.Keys.TakeWhile(d => d <= day - _options.KeptFits).ToList()) _fits.Remove(old);
        var parts = _days.Where(d => d.Key < day).Select(d => d.Value).ToList();
        foreach (var part in parts) part.Trim();
        if (parts.Sum(p => p.Count) == 0)
        {
            Fit = null;
            return;
        }
        Fit = PenalisedLikelihood.Fit(parts, _columns, _options.Penalty, Fit is { Outcome: FitOutcome.Converged } ? Fit : null);
        _fits.Add(day, Fit);
        Fits++;
        Passes += Fit.Passes;
    }
}
