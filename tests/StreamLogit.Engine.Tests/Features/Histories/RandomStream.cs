namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>Random streams of card payments: some keys frequent and most rare, pauses short and long, late events, missing fields, labels late or never.</summary>
internal static class RandomStream
{
    public static List<RandomStep> Steps(int seed, int cards, int events)
    {
        var random = new Random(seed);
        var steps = new List<RandomStep>();
        var due = new PriorityQueue<PastEvent, int>();
        long time = 1_767_225_600_000_000;
        for (int i = 0; i < events; i++)
        {
            while (due.TryPeek(out var labelled, out int at) && at <= i)
            {
                due.Dequeue();
                steps.Add(new RandomStep(labelled, random.Next(5) == 0 ? 1 : 0, random.Next(4) == 0 ? 2.5 : 1));
            }
            // Pauses from milliseconds to days.
            time += (long)Math.Pow(10, 3 + 4 * random.NextDouble() + (random.Next(300) == 0 ? 4 : 0));
            long late = random.Next(5) == 0 ? (long)Math.Pow(10, 3 + 8 * random.NextDouble()) : 0;
            var e = new PastEvent(
                random.Next(20) == 0 ? null : $"c{(int)(cards * Math.Pow(random.NextDouble(), 3))}",
                random.Next(20) == 0 ? null : $"s{random.Next(7)}",
                random.Next(10) == 0 ? null : Math.Round(Math.Exp(3 * random.NextDouble()) - 5, 2),
                time - late);
            steps.Add(new RandomStep(e));
            if (random.Next(3) > 0) due.Enqueue(e, i + (int)Math.Pow(10, 3 * random.NextDouble()));
        }
        return steps;
    }
}
