namespace StreamLogit.Engine.Health.Drift;

/// <summary>How the distribution of one feature is counted.</summary>
internal sealed class DriftProbe
{
    /// <summary>Hashed values share so many cells; what is merged only hides some drift, it never makes any up.</summary>
    public const int CategoryCells = 64;

    public DriftProbe(string name, DriftSource source, int[] fields, int firstCell)
    {
        Name = name;
        Source = source;
        Fields = fields;
        FirstCell = firstCell;
        Cells = source switch
        {
            DriftSource.None => 0,
            DriftSource.Category => CategoryCells,
            _ => QuantileCells.Count + 1, // the last one is for missing values
        };
        if (source is DriftSource.Number or DriftSource.Figure or DriftSource.LogOdds) Quantiles = new QuantileCells();
    }

    public string Name { get; }

    public DriftSource Source { get; }

    /// <summary>The places in the schema of the fields that the feature reads.</summary>
    public int[] Fields { get; }

    public int FirstCell { get; }

    public int Cells { get; }

    /// <summary>The cells of a number.</summary>
    public QuantileCells? Quantiles { get; }
}
