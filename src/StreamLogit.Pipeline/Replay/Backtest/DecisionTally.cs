namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>Counts a model's alerts and, in bins half a unit of log-odds wide, how far its probabilities came true.</summary>
internal sealed class DecisionTally(double cutoff)
{
    private const int Bins = 48;
    private const double BinsPerUnit = 2;
    private readonly Bin[] _bins = new Bin[Bins];
    private double _alerts;
    private double _trueAlerts;

    public void Add(double logOdds, double probability, int label, double weight)
    {
        ref var bin = ref _bins[(int)Math.Clamp(Math.Floor(logOdds * BinsPerUnit) + Bins / 2, 0, Bins - 1)];
        bin.Count++;
        bin.Weight += weight;
        bin.Probability += weight * probability;
        bin.Ones += weight * label;
        if (probability < cutoff) return;
        _alerts += weight;
        _trueAlerts += weight * label;
    }

    public DecisionFigures ToFigures() => new(
        cutoff, _bins.Sum(b => b.Weight), _alerts, _trueAlerts, _bins.Sum(b => b.Ones),
        [.. _bins.Where(b => b.Weight > 0).Select(b => new ReliabilityBin(b.Count, b.Weight, b.Probability / b.Weight, b.Ones / b.Weight))]);

    private struct Bin
    {
        public long Count;
        public double Weight;
        public double Probability;
        public double Ones;
    }
}
