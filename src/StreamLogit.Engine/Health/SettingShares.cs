namespace StreamLogit.Engine.Health;

/// <summary>
/// What each setting of the bank added since the last minute closed, told by the difference of its totals, so that nothing is counted for each label. Over a billion labels
/// the differences are good to about 1e-7.
/// </summary>
/// <param name="totals">The totals as the engine last told them.</param>
internal sealed class SettingShares(SettingTotals totals)
{
    private readonly SettingTotals _closed = new(totals.LogLoss.Length);

    /// <summary>Adds to a row what came since the last close, and the minutes since.</summary>
    public void AddTo(Span<double> numbers, long minutes)
    {
        HealthRow.Minutes(numbers) += minutes;
        for (int setting = 0; setting < totals.LogLoss.Length; setting++)
        {
            var sums = HealthRow.Setting(numbers, setting);
            sums[0] += totals.LogLoss[setting] - _closed.LogLoss[setting];
            sums[1] += totals.Brier[setting] - _closed.Brier[setting];
            sums[2] += totals.Weight[setting] - _closed.Weight[setting];
            sums[3] += totals.BlendWeight[setting] * minutes;
        }
    }

    public void Close()
    {
        totals.LogLoss.CopyTo(_closed.LogLoss, 0);
        totals.Brier.CopyTo(_closed.Brier, 0);
        totals.Weight.CopyTo(_closed.Weight, 0);
    }

    public void Save(BinaryWriter writer)
    {
        for (int setting = 0; setting < totals.LogLoss.Length; setting++)
        {
            writer.Write(_closed.LogLoss[setting]);
            writer.Write(_closed.Brier[setting]);
            writer.Write(_closed.Weight[setting]);
        }
    }

    /// <summary>Reads what <see cref="Save"/> wrote for settings some of which may be gone.</summary>
    /// <param name="reader">Where it is read from.</param>
    /// <param name="places">For each saved setting its place now, or -1.</param>
    public void Load(BinaryReader reader, ReadOnlySpan<int> places)
    {
        foreach (int place in places)
        {
            double logLoss = reader.ReadDouble(), brier = reader.ReadDouble(), weight = reader.ReadDouble();
            if (place >= 0) (_closed.LogLoss[place], _closed.Brier[place], _closed.Weight[place]) = (logLoss, brier, weight);
        }
    }
}
