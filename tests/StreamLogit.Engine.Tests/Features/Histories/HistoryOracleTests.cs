using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Tests.Features.Histories;

public class HistoryOracleTests
{
    private const long Hour = 3_600_000_000;

    // Scale none, so that the value is the figure.
    private static readonly HistoryFeature[] Histories =
    [
        new(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = Hour, Span = "1h", Scale = NumberScale.None },
        new(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = 24 * Hour, Span = "1d", Scale = NumberScale.None },
        new(HistoryKind.Sum, ["card"]) { Of = "amount", HalfLifeMicroseconds = Hour, Span = "1h", Scale = NumberScale.None },
        new(HistoryKind.Mean, ["card"]) { Of = "amount", HalfLifeMicroseconds = Hour, Span = "1h", Scale = NumberScale.None },
        new(HistoryKind.Deviation, ["card"]) { Of = "amount", HalfLifeMicroseconds = 24 * Hour, Span = "1d" },
        new(HistoryKind.Gap, ["card"]) { Scale = NumberScale.None },
        new(HistoryKind.New, ["card"]) { Of = "shop", WithinMicroseconds = 12 * Hour, Span = "12h" },
        new(HistoryKind.Rate, ["card"]) { HalfLifeMicroseconds = 24 * Hour, Span = "1d", Scale = NumberScale.None },
        new(HistoryKind.Rate, ["card", "shop"]) { HalfLifeMicroseconds = 240 * Hour, Span = "10d", Scale = NumberScale.None, Prior = 2 },
        new(HistoryKind.Count, ["shop"]) { HalfLifeMicroseconds = 60_000_000, Span = "1m", Scale = NumberScale.None },
    ];

    [Theory]
    [InlineData(1, 3)]
    [InlineData(2, 40)]
    [InlineData(3, 2000)]
    [InlineData(4, 9000)]
    public void Encode_RandomStream_IsWhatTheWholePastGives(int seed, int cards)
    {
        var run = new HistoryRun(Histories);
        var oracle = new HistoryOracle();
        var labelKeys = new Dictionary<PastEvent, ulong[]>(ReferenceEqualityComparer.Instance);
        foreach (var step in RandomStream.Steps(seed, cards, events: 2000))
        {
            if (step.Label is { } label)
            {
                oracle.Learn(step.Event, label, step.Weight);
                run.Learn(labelKeys[step.Event], step.Event.Time, label, step.Weight);
                continue;
            }
            double[] got = run.Encode(step.Event.Json());
            for (int i = 0; i < Histories.Length; i++)
            {
                if (oracle.Figure(Histories[i], step.Event) is { } expected) Assert.Equal(expected, got[i], Math.Max(1, Math.Abs(expected)) * 1e-9);
                else Assert.True(double.IsNaN(got[i]));
            }
            oracle.Add(Histories, step.Event);
            labelKeys[step.Event] = run.LabelKeys;
        }
    }

    [Theory]
    [InlineData(5)]
    [InlineData(6)]
    public void Encode_LittleMemoryAndCrashes_ChangeNoBit(int seed)
    {
        var random = new Random(seed);
        var whole = new HistoryRun(Histories);
        var small = new HistoryRun(Histories, memoryBytes: 1 << 20);
        var steps = RandomStream.Steps(seed, cards: 30_000, events: 40_000);
        var expected = new double[steps.Count][];
        var labelKeys = new Dictionary<PastEvent, ulong[]>(ReferenceEqualityComparer.Instance);
        int saved = 0;
        small.Save();
        for (int i = 0; i < steps.Count; i++)
        {
            expected[i] = Run(whole, steps[i]);
            Assert.Equal(expected[i], Run(small, steps[i]));
            if (random.Next(1000) == 0)
            {
                small.Save();
                saved = i + 1;
            }
            if (random.Next(3000) == 0)
            {
                small.Restart(memoryBytes: random.Next(2) == 0 ? 1 << 20 : 3 << 20);
                for (int again = saved; again <= i; again++) Assert.Equal(expected[again], Run(small, steps[again]));
            }
        }
        var figures = small.Encoder.HistoryFigures;
        Assert.InRange(figures.MemoryBytes, 1, 3 << 20);
        Assert.True(figures.Evictions > 10_000 && figures.Misses > 1000, figures.ToString());
        Assert.Equal(0, whole.Encoder.HistoryFigures.Evictions);

        double[] Run(HistoryRun run, RandomStep step)
        {
            if (step.Label is not { } label)
            {
                double[] values = run.Encode(step.Event.Json());
                labelKeys[step.Event] = run.LabelKeys;
                return values;
            }
            run.Learn(labelKeys[step.Event], step.Event.Time, label, step.Weight);
            return [];
        }
    }
}
