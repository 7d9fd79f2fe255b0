namespace StreamLogit.Engine.Definition;

/// <summary>Words for the figures below a bound: what stands before the number, and what behind it.</summary>
/// <param name="Below">It is for figures below this.</param>
/// <param name="Before">The words before the number.</param>
/// <param name="After">The words behind it, or null where the phrase has no number.</param>
/// <param name="Unit">The number is the figure's size divided by this.</param>
/// <param name="Format">The format of the number.</param>
public sealed record ReasonPhrase(double Below, string Before, string? After = null, double Unit = 1, string Format = "0")
{
    /// <summary>The number in the words for a figure.</summary>
    public double NumberOf(double figure) => Math.Abs(figure) / Unit;
}
