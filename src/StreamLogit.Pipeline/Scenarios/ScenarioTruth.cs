namespace StreamLogit.Pipeline.Scenarios;

/// <summary>What the generator knows about the labels that it wrote, for comparison with what a model reaches.</summary>
public sealed class ScenarioTruth
{
    private double _logLoss;
    private double _baseRateLogLoss;
    private double _brier;

    /// <summary>Events written.</summary>
    public long Events { get; internal set; }

    /// <summary>Labels written.</summary>
    public long Labels { get; private set; }

    /// <summary>Labels written that say bad.</summary>
    public long Bad { get; private set; }

    /// <summary>Mean log-loss of the true probabilities, in nats: no model can expect less. NaN without labels.</summary>
    public double LogLoss => _logLoss / Labels;

    /// <summary>Mean log-loss, in nats, of the Krichevsky-Trofimov predictor, which knows only how often labels were bad so far.</summary>
    public double BaseRateLogLoss => _baseRateLogLoss / Labels;

    /// <summary>Mean Brier score of the true probabilities.</summary>
    public double Brier => _brier / Labels;

    internal void AddLabel(double probability, bool isBad)
    {
        double rate = (Bad + 0.5) / (Labels + 1.0);
        _logLoss -= Math.Log(isBad ? probability : 1 - probability);
        _baseRateLogLoss -= Math.Log(isBad ? rate : 1 - rate);
        double error = probability - (isBad ? 1 : 0);
        _brier += error * error;
        Labels++;
        if (isBad) Bad++;
    }
}
