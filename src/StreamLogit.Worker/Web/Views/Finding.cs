namespace StreamLogit.Worker.Web.Views;

/// <summary>A sentence below the verdict.</summary>
/// <param name="IsNotable">Whether it asks for attention.</param>
/// <param name="Text">The sentence.</param>
internal sealed record Finding(bool IsNotable, string Text);
