namespace StreamLogit.Worker.Web.Views;

/// <summary>What a link asks for; whatever it leaves out is chosen for it.</summary>
/// <param name="Window">The window of the figures: one of the definition's, <see cref="ViewChoice.LastLabels"/> or <see cref="ViewChoice.All"/>.</param>
/// <param name="Slice">The slice, as <c>field=value</c>; <c>field</c> alone for all its values without figures of their own.</param>
/// <param name="Past">How far back curves go.</param>
internal readonly record struct ViewQuery(string? Window, string? Slice, string? Past);
