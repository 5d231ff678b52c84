using Qc.Records.People;
using Qc.Service.Features.People;
using Qc.Service.Http;

namespace Qc.Service.Hosting;

/// <summary>Makes the first administrator from QC_ADMIN_USER and QC_ADMIN_PASSWORD_FILE, where there is nobody yet.</summary>
internal static class FirstAdministrator
{
    public static async Task MakeAsync(IServiceProvider services, IConfiguration configuration)
    {
        string? user = configuration["QC_ADMIN_USER"];
        string? file = configuration["QC_ADMIN_PASSWORD_FILE"];
        await using AsyncServiceScope scope = services.CreateAsyncScope();
        ManagePeople people = scope.ServiceProvider.GetRequiredService<ManagePeople>();
        if (user is null || file is null || await people.AnybodyAsync(CancellationToken.None))
        {
            return;
        }

        var request = new PersonRequest { User = user, PrintedName = user, Password = (await File.ReadAllTextAsync(file)).Trim(), Roles = [Roles.Administrator] };
        Outcome<Person> made = await people.AddAsync(request, "service", CancellationToken.None);
        if (made.Problem is { } problem)
        {
            throw new InvalidOperationException($"The first administrator cannot be made: {problem.Detail}");
        }
    }
}
