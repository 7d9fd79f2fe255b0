using System.Collections.Immutable;
using System.Text.Json;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Tests.Health.Metrics;

/// <summary>Out-of-sample predictions of tests/data, with what R 4.2.2 (rms, pROC), scikit-learn and statsmodels say of them.</summary>
internal sealed class Predictions
{
    public const string BirdStrikes = "birdstrikes_last5000_outofsample";
    public const string Seattle = "seattle_rest_outofsample";

    private Predictions(string name)
    {
        var rows = TestData.Columns($"pred_{name}.csv", "p", "y");
        Probabilities = [.. rows.Select(r => r[0])];
        Labels = [.. rows.Select(r => (int)r[1])];
        Groups = ScoreGroups.Of(Probabilities, Labels);
        Reference = HealthReference.Root.GetProperty("predictions").GetProperty(name);
    }

    public static TheoryData<string> Names => [BirdStrikes, Seattle];

    public double[] Probabilities { get; }

    public int[] Labels { get; }

    public ImmutableArray<ScoreGroup> Groups { get; }

    public JsonElement Reference { get; }

    public static Predictions Of(string name) => new(name);

    /// <summary>A reference value by its path.</summary>
    public double Value(params string[] path)
    {
        var element = Reference;
        foreach (string key in path) element = element.GetProperty(key);
        return element.GetDouble();
    }

    /// <summary>A list of reference values by its path.</summary>
    public double[] Values(params string[] path)
    {
        var element = Reference;
        foreach (string key in path) element = element.GetProperty(key);
        return [.. element.EnumerateArray().Select(e => e.GetDouble())];
    }
}
