namespace StreamLogit.Engine.Health;

/// <summary>What the settings of the bank have come to over all labels, as the engine tells it to health.</summary>
/// <param name="settings">How many settings.</param>
internal sealed class SettingTotals(int settings)
{
    /// <summary>The sum of weight times log-loss of each setting.</summary>
    public double[] LogLoss { get; } = new double[settings];

    /// <summary>The sum of weight times Brier score of each setting.</summary>
    public double[] Brier { get; } = new double[settings];

    /// <summary>The sum of the weights of the labels that each setting learned.</summary>
    public double[] Weight { get; } = new double[settings];

    /// <summary>The present weight of each setting in the blend.</summary>
    public double[] BlendWeight { get; } = new double[settings];
}
