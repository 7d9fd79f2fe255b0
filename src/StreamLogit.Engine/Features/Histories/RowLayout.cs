namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// What stands where in the rows of a table: the hash of the key, its clock, the decayed words of every half-life next to each other, the steady words.
/// </summary>
internal sealed class RowLayout
{
    private const int HeaderWords = 2;
    private readonly Dictionary<(Type, long, (int, int)), Accumulator> _byIdentity = [];
    private readonly List<Accumulator> _accumulators = [];

    /// <summary>The accumulators, each once.</summary>
    public IReadOnlyList<Accumulator> Accumulators => _accumulators;

    /// <summary>For every half-life, in microseconds, the words that halve with it.</summary>
    public List<(long HalfLifeMicroseconds, int First, int Count)> DecayedWords { get; } = [];

    /// <summary>Words of a row.</summary>
    public int Words { get; private set; } = HeaderWords;

    /// <summary>The accumulator equal to this one, which is taken in where there is none yet.</summary>
    public T With<T>(T accumulator) where T : Accumulator
    {
        var identity = (typeof(T), accumulator.HalfLifeMicroseconds, accumulator.Identity);
        if (_byIdentity.TryGetValue(identity, out var known)) return (T)known;
        _byIdentity[identity] = accumulator;
        _accumulators.Add(accumulator);
        return accumulator;
    }

    /// <summary>Gives every accumulator its words, when all are taken in.</summary>
    public void Arrange()
    {
        foreach (var group in _accumulators.GroupBy(a => a.HalfLifeMicroseconds))
        {
            int first = Words;
            foreach (var accumulator in group)
            {
                accumulator.HalfLifeIndex = DecayedWords.Count;
                accumulator.Decayed = Words;
                Words += accumulator.DecayedWords;
            }
            DecayedWords.Add((group.Key, first, Words - first));
        }
        foreach (var accumulator in _accumulators)
        {
            accumulator.Steady = Words;
            Words += accumulator.SteadyWords;
        }
    }
}
