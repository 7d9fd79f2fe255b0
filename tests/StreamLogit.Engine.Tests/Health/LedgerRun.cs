using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Persistence;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Health;

/// <summary>A ledger that is given labels by hand.</summary>
internal sealed class LedgerRun
{
    public const long Minute = 60_000_000;
    public const long Hour = 60 * Minute;
    public const long Day = 24 * Hour;

    private readonly EngineDefinition _definition;
    private long _clock = long.MinValue;

    public LedgerRun(HealthOptions? options = null)
    {
        _definition = Definitions.Of(new NumberFeature("x", NumberScale.None)) with { Health = options ?? new HealthOptions() };
        Ledger = Create();
    }

    public HealthLedger Ledger { get; private set; }

    public double Cutoff { get; init; } = 0.5;

    public HealthSnapshot Snapshot => Ledger.Snapshot(_clock);

    public LedgerRun MoveTo(long clock)
    {
        _clock = Math.Max(_clock, clock);
        if (Ledger.IsMinuteOver(_clock) && !Ledger.TryKeepOpen(_clock)) Ledger.StartMinute(_clock);
        return this;
    }

    public (CountedLabel Label, LabelCount Count) Label(long clock, double logOdds, int label, double weight = 1, long delay = 0, int standsFor = 1)
    {
        MoveTo(clock);
        var counted = new CountedLabel
        {
            LogOdds = logOdds,
            Label = label,
            Weight = weight,
            ClockMicroseconds = _clock,
            ScoredAtMicroseconds = _clock - delay,
            StandsFor = standsFor,
            Alert = 1 / (1 + Math.Exp(-logOdds)) >= Cutoff ? 1 : 0,
        };
        return (counted, Ledger.CountLabel(counted));
    }

    public void Resume(StateBlocks kept)
    {
        Ledger.Save(kept);
        Ledger = Create();
        Ledger.Load(kept);
    }

    private HealthLedger Create() => new(_definition, new RecordSchema(_definition), ["one", "two"]);
}
