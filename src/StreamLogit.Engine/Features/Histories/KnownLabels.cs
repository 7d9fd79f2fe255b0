namespace StreamLogit.Engine.Features.Histories;

/// <summary>The decayed number of known labels of a key and of those that are 1, each decayed from the time of its event.</summary>
internal sealed class KnownLabels(long halfLifeMicroseconds) : Accumulator(halfLifeMicroseconds)
{
    public override int DecayedWords => 2;

    public double Labels(Span<double> row) => row[Decayed];

    public double Bad(Span<double> row) => row[Decayed + 1];

    public void Learn(Span<double> row, int label, double weight)
    {
        row[Decayed] += weight;
        if (label == 1) row[Decayed + 1] += weight;
    }
}
