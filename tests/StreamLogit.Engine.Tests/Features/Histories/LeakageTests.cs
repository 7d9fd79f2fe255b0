using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Tests.Features.Histories;

public class LeakageTests
{
    private static readonly HistoryFeature[] Histories =
    [
        new(HistoryKind.Rate, ["card"]) { HalfLifeMicroseconds = 86_400_000_000, Span = "1d" },
        new(HistoryKind.Rate, ["shop"]) { HalfLifeMicroseconds = 3_600_000_000, Span = "1h" },
        new(HistoryKind.Rate, ["card", "shop"]) { HalfLifeMicroseconds = 864_000_000_000, Span = "10d", Scale = NumberScale.Rank },
        new(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = 3_600_000_000, Span = "1h" },
    ];

    [Theory]
    [InlineData(11)]
    [InlineData(12)]
    [InlineData(13)]
    public void Encode_LabelsThatBecomeKnownLaterAreShuffled_StaysTheSame(int seed)
    {
        var steps = RandomStream.Steps(seed, cards: 20, events: 3000);
        var original = Encoded(steps);
        var random = new Random(seed);
        for (int round = 0; round < 10; round++)
        {
            int now = random.Next(steps.Count / 4, steps.Count - 300);
            int[] later = [.. Enumerable.Range(now, steps.Count - now).Where(i => steps[i].Label is not null)];
            int?[] labels = [.. later.Select(i => steps[i].Label)];
            random.Shuffle(labels);
            var shuffled = steps.ToList();
            for (int i = 0; i < later.Length; i++) shuffled[later[i]] = steps[later[i]] with { Label = labels[i] };

            var encoded = Encoded(shuffled);

            for (int i = 0; i <= now; i++) Assert.Equal(original[i], encoded[i]);
            Assert.Contains(Enumerable.Range(now, steps.Count - now), i => !original[i].SequenceEqual(encoded[i])); // labels do count
        }
    }

    private static List<double[]> Encoded(List<RandomStep> steps)
    {
        var run = new HistoryRun(Histories);
        var labelKeys = new Dictionary<PastEvent, ulong[]>(ReferenceEqualityComparer.Instance);
        var encoded = new List<double[]>();
        foreach (var step in steps)
        {
            if (step.Label is { } label)
            {
                run.Learn(labelKeys[step.Event], step.Event.Time, label, step.Weight);
                encoded.Add([]);
                continue;
            }
            encoded.Add(run.Encode(step.Event.Json()));
            labelKeys[step.Event] = run.LabelKeys;
        }
        return encoded;
    }
}
