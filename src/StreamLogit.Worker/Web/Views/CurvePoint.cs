using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Points of a history that stand together for one step of a curve. Sums are exact.</summary>
/// <param name="fromMicroseconds">When the step starts.</param>
/// <param name="settings">How many settings the bank has.</param>
internal sealed class CurvePoint(long fromMicroseconds, int settings)
{
    private readonly double[] _blend = new double[settings];
    private double _blendLength;
    private double _weight;
    private double _logLoss;
    private double _baseRateLogLoss;
    private double _expected;
    private double _variance;
    private double _came;
    private double _delaySeconds;

    public long FromMicroseconds => fromMicroseconds;

    public long Labels { get; private set; }

    public PromisedPositives Promised => new(_expected, _variance, _came);

    /// <summary>Mean log-loss; NaN without labels.</summary>
    public double LogLoss => _logLoss / _weight;

    /// <summary>The base rate's; NaN without labels.</summary>
    public double BaseRateLogLoss => _baseRateLogLoss / _weight;

    public long Events { get; private set; }

    public long Alerts { get; private set; }

    public long Rejects { get; private set; }

    public long LateLabels { get; private set; }

    /// <summary>The mean delay of labels that came late; NaN without any.</summary>
    public double MeanDelaySeconds => _delaySeconds / LateLabels;

    /// <summary>A setting's mean weight in the blend over the time that the points cover.</summary>
    public double BlendWeight(int setting) => _blend[setting] / _blendLength;

    public void Add(HistoryPoint point)
    {
        var figures = point.Figures;
        if (figures.Weight > 0)
        {
            Labels += figures.Count;
            _weight += figures.Weight;
            _logLoss += figures.Weight * figures.LogLoss;
            _baseRateLogLoss += figures.Weight * figures.BaseRateLogLoss;
            _expected += figures.Promised.Expected;
            _variance += figures.Promised.Variance;
            _came += figures.Promised.Came;
        }
        if (point.Stream is { } stream)
        {
            Events += stream.Events;
            Alerts += stream.Alerts;
            Rejects += stream.Rejects;
            LateLabels += stream.LateLabels;
            if (stream.LateLabels > 0) _delaySeconds += stream.LateLabels * stream.MeanDelaySeconds;
        }
        if (point.Settings.Length != _blend.Length) return;
        _blendLength += point.LengthMicroseconds;
        for (int i = 0; i < _blend.Length; i++) _blend[i] += point.LengthMicroseconds * point.Settings[i].BlendWeight;
    }
}
