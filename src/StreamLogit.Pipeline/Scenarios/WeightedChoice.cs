namespace StreamLogit.Pipeline.Scenarios;

/// <summary>One of several names, each with its share and its part in the true log-odds.</summary>
internal sealed class WeightedChoice(params (string Name, double Share, double LogOdds)[] entries)
{
    /// <summary>The place of the entry that a number from 0 to 1 falls on when the entries are laid end to end by their shares.</summary>
    public int At(double position)
    {
        double sum = 0;
        for (int i = 0; i < entries.Length - 1; i++)
        {
            sum += entries[i].Share;
            if (position < sum) return i;
        }
        return entries.Length - 1;
    }

    /// <summary>The name of an entry.</summary>
    public string Name(int index) => entries[index].Name;

    /// <summary>What an entry adds to the log-odds.</summary>
    public double LogOdds(int index) => entries[index].LogOdds;
}
