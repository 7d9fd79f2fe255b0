using StreamLogit.Pipeline.Definition;
using StreamLogit.Worker.Alarms;
using StreamLogit.Worker.Web.Access;

namespace StreamLogit.Worker.Hosting;

/// <summary>What a worker tells, and to whom, with the secrets that it takes at hand.</summary>
/// <param name="Definition">The stream.</param>
/// <param name="Page">Where the page is served and who may see it, or null where there is none.</param>
/// <param name="Webhook">Where changes of alarms are sent, or null.</param>
internal sealed record WorkerSetup(StreamDefinition Definition, PageAccess? Page, WebhookTarget? Webhook)
{
    /// <summary>Reads what the definition names.</summary>
    /// <exception cref="WrongInputException">A secret or a certificate cannot be used.</exception>
    public static WorkerSetup Read(StreamDefinition definition) => new(
        definition,
        definition.Listen is { } listen ? PageAccess.Read(listen) : null,
        definition.Webhook is { } webhook ? WebhookTarget.Read(webhook) : null);
}
